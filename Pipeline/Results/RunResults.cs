using Pipeline.Analysis;
using Pipeline.Hdf5;
using Pipeline.Reports;

namespace Pipeline.Results;

/// <summary>The result files of a run and of a night.</summary>
public static class RunResults
{
    /// <summary>Writes every file aside and renames it; result.json comes last, so that it stands only beside the files it speaks of.</summary>
    public static void Write(string folder, RunOutcome run)
    {
        Atomically.Write(Path.Combine(folder, "spectrum.csv"), SpectrumFiles.SpectrumCsv(run));
        Atomically.Write(Path.Combine(folder, "signal.csv"), SpectrumFiles.SignalCsv(run));
        Hdf5Tree tree = SpectrumFiles.SpectrumHdf5(run);
        tree.Write(Path.Combine(folder, "spectrum.h5"));
        Atomically.Write(Path.Combine(folder, "report.html"), RunPage.Render(run));
        Atomically.Write(Path.Combine(folder, "result.json"), ResultJson.Render(run));
    }

    /// <summary>The night's page and table.</summary>
    public static void Write(string folder, NightOutcome night)
    {
        Atomically.Write(Path.Combine(folder, "night.csv"), NightTable.Render(night));
        Atomically.Write(Path.Combine(folder, "night.html"), NightPage.Render(night));
    }

    /// <summary>A run that failed leaves no result that could be taken for one of this night.</summary>
    public static void RemoveStale(string folder)
    {
        if (!Directory.Exists(folder)) return;
        foreach (string name in (string[])["result.json", "report.html", "spectrum.csv", "signal.csv", "spectrum.h5"])
            File.Delete(Path.Combine(folder, name));
    }
}
