BEGIN TRANSACTION;
CREATE TABLE alembic_version (
	version_num VARCHAR(32) NOT NULL, 
	CONSTRAINT alembic_version_pkc PRIMARY KEY (version_num)
);
INSERT INTO "alembic_version" VALUES('0001');
CREATE TABLE files (
	id VARCHAR NOT NULL, 
	study_id VARCHAR NOT NULL, 
	file_name TEXT NOT NULL, 
	fingerprint VARCHAR NOT NULL, 
	size INTEGER NOT NULL, 
	reading TEXT NOT NULL, 
	rows INTEGER NOT NULL, 
	columns INTEGER NOT NULL, 
	received_at DATETIME NOT NULL, 
	current BOOLEAN NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (id), 
	CONSTRAINT files_once_in_a_study UNIQUE (study_id, fingerprint), 
	FOREIGN KEY(study_id) REFERENCES studies (id) ON DELETE CASCADE
);
INSERT INTO "files" VALUES('0000000000000002','0000000000000001','garden centres.csv','52cc83df6ffe67d4c64fc7380e071a15291f41eb8809a7b6ddfdbc5dd7d4653c',18,'{"encoding":"utf-8"}',1,2,'2026-03-12 09:52:00.000000',1,1,'2026-03-12 09:52:00.000000');
CREATE TABLE kept_figures (
	id VARCHAR NOT NULL, 
	study_id VARCHAR NOT NULL, 
	request TEXT NOT NULL, 
	position INTEGER NOT NULL, 
	headline TEXT NOT NULL, 
	comment TEXT NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (id), 
	FOREIGN KEY(study_id) REFERENCES studies (id) ON DELETE CASCADE
);
INSERT INTO "kept_figures" VALUES('0000000000000003','0000000000000001','{"question":"q4","statistic":"share","answers":["9","10"],"group_question":"","group_answer":"","confidence":0.95,"method":"wilson","missing_counted":false,"split_by":""}',0,'Most are satisfied','',2,'2026-03-12 09:52:00.000000');
CREATE TABLE links (
	id INTEGER NOT NULL, 
	token_hash VARCHAR NOT NULL, 
	readout_id VARCHAR, 
	made_at DATETIME NOT NULL, 
	expires_at DATETIME, 
	revoked_at DATETIME, 
	PRIMARY KEY (id), 
	UNIQUE (token_hash), 
	FOREIGN KEY(readout_id) REFERENCES readouts (id) ON DELETE SET NULL
);
INSERT INTO "links" VALUES(1,'aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa','0000000000000004','2026-03-12 09:52:00.000000','2026-04-11 09:52:00.000000','2026-03-12 09:52:00.000000');
INSERT INTO "links" VALUES(2,'bbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbb','0000000000000004','2026-03-12 09:52:00.000000',NULL,NULL);
CREATE TABLE questions (
	study_id VARCHAR NOT NULL, 
	"key" TEXT NOT NULL, 
	position INTEGER NOT NULL, 
	question TEXT NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (study_id, "key"), 
	FOREIGN KEY(study_id) REFERENCES studies (id) ON DELETE CASCADE
);
INSERT INTO "questions" VALUES('0000000000000001','region',0,'{"key":"region","columns":["region"],"kind":"one answer","text":"Region","answers":[{"code":"north","label":"north"}],"missing":[],"proposals":[],"evidence":"","set_aside":false}',1,'2026-03-12 09:52:00.000000');
INSERT INTO "questions" VALUES('0000000000000001','q4',1,'{"key":"q4","columns":["q4"],"kind":"scale","text":"How satisfied are you?","answers":[],"missing":[{"code":"99","reason":"refused"}],"proposals":[],"evidence":"","set_aside":false}',1,'2026-03-12 09:52:00.000000');
CREATE TABLE readouts (
	id VARCHAR NOT NULL, 
	study_id VARCHAR NOT NULL, 
	number INTEGER NOT NULL, 
	title TEXT NOT NULL, 
	frozen TEXT NOT NULL, 
	html TEXT NOT NULL, 
	methods_version INTEGER NOT NULL, 
	published_at DATETIME NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (id), 
	CONSTRAINT readouts_numbered_in_a_study UNIQUE (study_id, number), 
	FOREIGN KEY(study_id) REFERENCES studies (id) ON DELETE CASCADE
);
INSERT INTO "readouts" VALUES('0000000000000004','0000000000000001',1,'Spring','{"number":1}','<p>Readout 1</p>',1,'2026-03-12 09:52:00.000000',2,'2026-03-12 09:52:00.000000');
CREATE TABLE sampling_plans (
	study_id VARCHAR NOT NULL, 
	"plan" TEXT NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (study_id), 
	FOREIGN KEY(study_id) REFERENCES studies (id) ON DELETE CASCADE
);
INSERT INTO "sampling_plans" VALUES('0000000000000001','{"universe":"all garden centres","unit_one":"respondent","unit_many":"respondents","universe_size":1184,"as_of":"","source":"","method":"drawn by chance from a list","replacement":false,"strata_column":"region","strata":[{"label":"north","population_size":310}],"weights_column":"","clusters_column":"","universe_clusters":null,"provisional":false}',1,'2026-03-12 09:52:00.000000');
CREATE TABLE studies (
	id VARCHAR NOT NULL, 
	name TEXT NOT NULL, 
	decimal_mark VARCHAR NOT NULL, 
	house_limit TEXT NOT NULL, 
	created_at DATETIME NOT NULL, 
	touched_at DATETIME NOT NULL, 
	version INTEGER NOT NULL, 
	changed_at DATETIME NOT NULL, 
	PRIMARY KEY (id), 
	CONSTRAINT studies_decimal_mark CHECK (decimal_mark IN ('.', ','))
);
INSERT INTO "studies" VALUES('0000000000000001','Garden centres, spring','.','{"share_points":10.0,"scale_part":0.05,"number_part":0.25,"note_part":0.7,"smallest_base":30}','2026-03-12 09:52:00.000000','2026-03-12 09:52:00.000000',1,'2026-03-12 09:52:00.000000');
CREATE INDEX ix_files_fingerprint ON files (fingerprint);
CREATE UNIQUE INDEX files_one_current_in_a_study ON files (study_id) WHERE current = 1;
CREATE INDEX ix_kept_figures_study_id ON kept_figures (study_id);
CREATE INDEX ix_links_readout_id ON links (readout_id);
COMMIT;
