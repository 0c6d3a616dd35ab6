package main

// query is one question in the words of the three; what is empty is as ours.
type query struct {
	name       string
	ours       string
	lite, duck string
}

var queries = []query{
	{name: "filtered count", ours: "SELECT COUNT(*) FROM log WHERE temp > 8"},
	{name: "1,000 integer keys, AVG", ours: "SELECT site, AVG(temp) FROM log GROUP BY site ORDER BY site"},
	{name: "1,000 text keys, AVG", ours: "SELECT logger, AVG(temp) FROM log GROUP BY logger ORDER BY logger"},
	{name: "by hour, three aggregates",
		ours: "SELECT FLOOR_TO(t, INTERVAL '1' HOUR) AS h, AVG(temp), MIN(temp), MAX(temp) FROM log GROUP BY FLOOR_TO(t, INTERVAL '1' HOUR) ORDER BY h",
		lite: "SELECT t - t % 3600000000 AS h, AVG(temp), MIN(temp), MAX(temp) FROM log GROUP BY h ORDER BY h",
		duck: "SELECT date_trunc('hour', t) AS h, AVG(temp), MIN(temp), MAX(temp) FROM log GROUP BY h ORDER BY h"},
	{name: "join by text, weighted mean per instant",
		ours: "SELECT t, AVG(temp) WEIGHTED BY volume FROM log JOIN places ON logger = id GROUP BY t ORDER BY t",
		lite: "SELECT t, SUM(temp * volume) / SUM(CASE WHEN temp IS NOT NULL THEN volume END) FROM log JOIN places ON logger = id GROUP BY t ORDER BY t",
		duck: "SELECT t, SUM(temp * volume) / SUM(CASE WHEN temp IS NOT NULL THEN volume END) FROM log JOIN places ON logger = id GROUP BY t ORDER BY t"},
	{name: "join by number, weighted mean per instant",
		ours: "SELECT t, AVG(temp) WEIGHTED BY volume FROM log JOIN places ON log.site = places.site GROUP BY t ORDER BY t",
		lite: "SELECT t, SUM(temp * volume) / SUM(CASE WHEN temp IS NOT NULL THEN volume END) FROM log JOIN places ON log.site = places.site GROUP BY t ORDER BY t",
		duck: "SELECT t, SUM(temp * volume) / SUM(CASE WHEN temp IS NOT NULL THEN volume END) FROM log JOIN places ON log.site = places.site GROUP BY t ORDER BY t"},
	{name: "top 10", ours: "SELECT t, site, temp FROM log WHERE temp IS NOT NULL ORDER BY temp DESC, t, site LIMIT 10"},
	{name: "distinct count of instants", ours: "SELECT COUNT(DISTINCT t) FROM log"},
	{name: "distinct count by logger", ours: "SELECT logger, COUNT(DISTINCT temp) FROM log GROUP BY logger ORDER BY logger"},
	{name: "correlated: above the logger's own mean",
		ours: "SELECT COUNT(*) FROM log l WHERE temp > 2 + (SELECT AVG(m.temp) FROM log m WHERE m.site = l.site)"},
	{name: "correlated: each site's warmest",
		ours: "SELECT id, (SELECT MAX(temp) FROM log l WHERE l.logger = p.id) FROM places p ORDER BY id"},
	{name: "window: largest step of a logger",
		ours: "SELECT MAX(d), MIN(d), COUNT(d) FROM (SELECT temp - LAG(temp) OVER (PARTITION BY site ORDER BY t) AS d FROM log) AS steps"},
	{name: "window: place within the instant",
		ours: "SELECT site, COUNT(*) FROM (SELECT site, RANK() OVER (PARTITION BY t ORDER BY temp DESC) AS r FROM log WHERE temp IS NOT NULL) AS ranked WHERE r <= 3 GROUP BY site ORDER BY site"},
}

func (q *query) forLite() string { return or(q.lite, q.ours) }
func (q *query) forDuck() string { return or(q.duck, q.ours) }

func or(a, b string) string {
	if a != "" {
		return a
	}
	return b
}
