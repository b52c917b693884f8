#!/bin/bash
# Run once by the PostgreSQL image, on an empty data folder: the role that owns the tables, the
# role the app connects with (row-level security holds for it), and the database.
set -euo pipefail
psql --no-psqlrc --set=ON_ERROR_STOP=1 --username "$POSTGRES_USER" --dbname postgres \
  --set=owner="$SPOTBLUE_OWNER_PASSWORD" --set=app="$SPOTBLUE_APP_PASSWORD" <<'SQL'
create role spotblue_owner login nosuperuser nobypassrls nocreatedb nocreaterole noreplication password :'owner';
create role spotblue_app login nosuperuser nobypassrls nocreatedb nocreaterole noreplication password :'app';
create database spotblue owner spotblue_owner;
SQL
