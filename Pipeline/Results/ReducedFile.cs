using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Results;

/// <summary>A <see cref="BinnedRun"/> as reduced.h5: what the ingest stage leaves for the fit.</summary>
static class ReducedFile
{
    const string Name = "reduced.h5";

    public static void Write(string folder, string fingerprint, BinnedRun run)
    {
        var tree = new Hdf5Tree();
        tree.Dataset("fingerprint", new[] { fingerprint });
        tree.Dataset("detector_kind", new[] { run.DetectorKind.ToString() });
        tree.Dataset("shots_read", new[] { (double)run.ShotsRead });
        tree.Dataset("remarks", run.Remarks.DefaultIfEmpty("").ToArray());
        tree.Dataset("cut_reasons", run.Cuts.Select(c => c.Reason).DefaultIfEmpty("").ToArray());
        for (int k = 0; k < run.Cuts.Count; k++) tree.Dataset($"cut_{k}_shots", run.Cuts[k].Numbers.Select(n => (double)n).ToArray());
        tree.Dataset("axis_origin_and_tick_s", new[] { run.Axis.OriginSeconds, run.Axis.TickSeconds });
        tree.Dataset("axis_edges_ticks", run.Axis.Edges.Select(e => (double)e).ToArray());
        tree.Dataset("group_conditions", run.Groups.Select(g => g.Condition).ToArray());
        tree.Dataset("group_kinds", run.Groups.Select(g => g.Kind.ToString()).ToArray());
        for (int k = 0; k < run.Groups.Count; k++) WriteGroup(tree.Group($"group_{k}"), run.Groups[k], run.Axis.Bins);
        Atomically.MakeFolder(folder);
        tree.Write(Path.Combine(folder, Name));
    }

    static void WriteGroup(Hdf5Tree tree, ShotGroup group, int bins)
    {
        var sums = new double[group.BlockSums.Length, bins];
        for (int b = 0; b < group.BlockSums.Length; b++) for (int i = 0; i < bins; i++) sums[b, i] = group.BlockSums[b][i];
        tree.Dataset("block_sums", sums);
        tree.Dataset("block_shots", group.BlockShots);
        tree.Dataset("block_probe_monitor_v", group.BlockProbeMonitor);
        tree.Dataset("block_ablation_monitor_v", group.BlockAblationMonitor);
        tree.Dataset("point_and_detuning_hz", new[] { group.Point, group.Detuning });
        tree.Dataset("order_in_run", new[] { group.Order });
        tree.Dataset("baseline_variance_v2", new[] { group.BaselineVariance });
        tree.Dataset("full_sum", group.FullSum);
    }

    /// <summary>The run of this fingerprint, or null where there is none.</summary>
    public static BinnedRun? Read(string folder, string fingerprint)
    {
        string path = Path.Combine(folder, Name);
        if (!File.Exists(path)) return null;
        try
        {
            using IHdf5File file = Hdf5Files.Open(path);
            return file.ReadLabels("fingerprint")[0] == fingerprint ? Read(file) : null;
        }
        catch (DataFaultException)
        {
            return null; // damaged, or of another version: reduced again
        }
    }

    static BinnedRun Read(IHdf5File file)
    {
        string[] conditions = file.ReadLabels("group_conditions"), kinds = file.ReadLabels("group_kinds"), reasons = file.ReadLabels("cut_reasons");
        double[] origin = file.ReadNumbers("axis_origin_and_tick_s");
        var axis = new SignalAxis(origin[0], origin[1], [.. file.ReadNumbers("axis_edges_ticks").Select(e => (int)e)]);
        return new BinnedRun
        {
            DetectorKind = Enum.Parse<DetectorKind>(file.ReadLabels("detector_kind")[0]),
            Axis = axis,
            ShotsRead = (int)file.ReadNumbers("shots_read")[0],
            Remarks = [.. file.ReadLabels("remarks").Where(r => r.Length > 0)],
            Cuts = [.. reasons.Where(r => r.Length > 0).Select((r, k) => new ShotCut(r, [.. file.ReadNumbers($"cut_{k}_shots").Select(n => (long)n)]))],
            Groups = [.. conditions.Select((c, k) => ReadGroup(file, $"group_{k}", c, Enum.Parse<ShotKind>(kinds[k]), axis.Bins))],
        };
    }

    static ShotGroup ReadGroup(IHdf5File file, string at, string condition, ShotKind kind, int bins)
    {
        double[] shots = file.ReadNumbers($"{at}/block_shots"), sums = file.ReadReals($"{at}/block_sums", 0, shots.Length);
        double[] point = file.ReadNumbers($"{at}/point_and_detuning_hz");
        return new ShotGroup
        {
            Condition = condition, Kind = kind, Point = (int)point[0], Detuning = point[1], Order = file.ReadNumbers($"{at}/order_in_run")[0], BlockShots = shots,
            BlockSums = [.. Enumerable.Range(0, shots.Length).Select(b => sums[(b * bins)..((b + 1) * bins)])],
            BlockProbeMonitor = file.ReadNumbers($"{at}/block_probe_monitor_v"),
            BlockAblationMonitor = file.ReadNumbers($"{at}/block_ablation_monitor_v"),
            BaselineVariance = file.ReadNumbers($"{at}/baseline_variance_v2")[0],
            FullSum = file.ReadNumbers($"{at}/full_sum"),
        };
    }
}
