using Pipeline.Analysis; namespace Pipeline.Reports; public static class NightTable { public static string Render(NightOutcome o) => o.ToString(); }
