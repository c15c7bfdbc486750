using Pipeline.Analysis; namespace Pipeline.Reports; public static class NightPage { public static string Render(NightOutcome o) => o.ToString(); }
