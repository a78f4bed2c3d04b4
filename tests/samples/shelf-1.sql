BEGIN TRANSACTION;
CREATE TABLE sheet (
            id TEXT PRIMARY KEY,
            revision INTEGER NOT NULL,
            writer TEXT NOT NULL,
            saved TEXT NOT NULL,
            app_version TEXT NOT NULL,
            document TEXT NOT NULL
        ) STRICT
        ;
INSERT INTO "sheet" VALUES('0123456789ab',1,'ba9876543210','2026-12-01T12:00:00+00:00','0.1.0','{"sheet": {"arms": ["Compression review", "Usual care"], "confidence_level": "95", "invented": true, "outcomes": [{"arms": [{"events": "46", "non_events": "", "percentage": "", "total": "418"}, {"events": "", "non_events": "", "percentage": "16·4%", "total": "409"}], "counted": "a recurrence", "event_is": "unwanted", "follow_up": "fixed", "horizon": "12 months", "name": "Recurrence"}, {"arms": [{"events": "51", "non_events": "", "percentage": "", "total": "418"}, {"events": "23", "non_events": "", "percentage": "", "total": "409"}], "counted": "skin irritation", "event_is": "unwanted", "follow_up": "fixed", "horizon": "12 months", "name": "Skin irritation"}], "reference": "Parallel trial, 854 randomised, one clinic network", "title": "Nurse-led compression review after a healed leg ulcer"}, "version": 1}');
COMMIT;
PRAGMA user_version = 1;
