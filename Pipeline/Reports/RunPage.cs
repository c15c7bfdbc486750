using Pipeline.Analysis; namespace Pipeline.Reports; public static class RunPage { public static string Render(RunOutcome o) => o.ToString(); }
