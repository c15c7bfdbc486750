using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>The signal of a condition, binned as its mode wants it.</summary>
static class ModeSignal
{
    public static NetSignal Of(BinnedRun run, string condition, IBackgroundModel background, Scanned scanned, Detector detector, FitSettings settings) =>
        scanned == Scanned.Nothing ? background.Subtract(run, condition, detector) : ScanSignal.Of(run, condition, background, scanned, detector, settings);
}

/// <summary>A laser scan: the background is known from all points together, and stands under each by that point's shots and monitors. Points
/// with a stronger source count as more shots: exposure goes with the mean ablation monitor.</summary>
static class ScanSignal
{
    /// <summary>Time bins of a map widen with time.</summary>
    const double MapWidth = 0.06;

    public static NetSignal Of(BinnedRun run, string condition, IBackgroundModel background, Scanned scanned, Detector detector, FitSettings settings)
    {
        IReadOnlyList<ShotGroup> points = run.Scan(condition);
        if (points.Count < 3)
            throw new DataFaultException($"scan of condition \"{condition}\"", $"{points.Count} points", "three or more readings of the laser", "record a scan, or analyse the run with mode = \"arrival\"");
        IBackgroundFit fit = background.Fit(run.WithoutPoints(), condition, detector);
        int[] edges = TimeEdges(run.Axis, scanned, settings);
        NetSignal[] parts = [.. points.Select(fit.Under)];
        double shots = points.Sum(p => p.Shots), monitor = points.Sum(p => p.BlockAblationMonitor.Sum()) / shots;
        var axis = new SignalAxis(run.Axis.OriginSeconds, run.Axis.TickSeconds, [.. edges.Select(e => run.Axis.Edges[e])], [.. points.Select(p => p.Detuning)], Light(points), [.. points.Select(p => p.Order)]);
        double[] Stack(Func<NetSignal, double[]> of) => [.. parts.SelectMany(p => Rebin(of(p), edges))];
        return new NetSignal
        {
            Axis = axis, Condition = condition, DetectorKind = run.DetectorKind, Shots = shots,
            Total = Stack(p => p.Total), Background = Stack(p => p.Background), BackgroundVariance = Stack(p => p.BackgroundVariance),
            TotalVariance = parts[0].TotalVariance is null ? null : Stack(p => p.TotalVariance!),
            Live = [.. parts.Zip(points, (part, point) => Live(part, edges, Share(point, shots, monitor))).SelectMany(l => l)],
            Causes = [.. parts[0].Causes.Select((cause, k) => new CommonCause(cause.Name, Stack(p => p.Causes[k].Vector)))],
            Remarks = [.. parts.SelectMany(p => p.Remarks).Distinct(StringComparer.Ordinal)],
        };
    }

    /// <summary>What one point is of all shots, by number and strength.</summary>
    static double Share(ShotGroup point, double shots, double monitor)
    {
        double own = point.BlockAblationMonitor.Sum() / point.Shots;
        return point.Shots / shots * (double.IsFinite(own) && monitor > 0 && own > 0 ? own / monitor : 1);
    }

    /// <summary>[points] mean reading of the probe monitor relative to all of the scan; 1 without a monitor. A laser that drifts while it is scanned would
    /// otherwise look like more molecules of one speed.</summary>
    static double[] Light(IReadOnlyList<ShotGroup> points)
    {
        double mean = points.Sum(p => p.BlockProbeMonitor.Sum()) / points.Sum(p => p.Shots);
        return [.. points.Select(p => p.BlockProbeMonitor.Sum() / p.Shots / mean).Select(l => double.IsFinite(l) && l > 0 ? l : 1)];
    }

    static IEnumerable<double> Live(NetSignal part, int[] edges, double share)
    {
        for (int b = 0; b + 1 < edges.Length; b++)
        {
            (double live, double width) = (0, 0);
            for (int i = edges[b]; i < edges[b + 1]; i++) (live, width) = (live + part.Live[i] * part.Axis.WidthSeconds(i), width + part.Axis.WidthSeconds(i));
            yield return share * live / width;
        }
    }

    static IEnumerable<double> Rebin(double[] fine, int[] edges)
    {
        for (int b = 0; b + 1 < edges.Length; b++) yield return fine.AsSpan(edges[b], edges[b + 1] - edges[b]).ToArray().Sum();
    }

    /// <summary>Positions of edges of the fine axis.</summary>
    static int[] TimeEdges(SignalAxis axis, Scanned scanned, FitSettings settings)
    {
        int first = Enumerable.Range(0, axis.TimeBins + 1).FirstOrDefault(e => axis.EdgeSeconds(e) >= settings.FromSeconds - 1e-12, -1);
        int last = Enumerable.Range(0, axis.TimeBins + 1).LastOrDefault(e => axis.EdgeSeconds(e) <= (settings.ToSeconds ?? double.PositiveInfinity) + 1e-12, -1);
        if (first < 0 || last <= first)
            throw new DataFaultException("fit window of the scan", "no time bins", "a window inside the record", "correct fit_from and fit_to in night.toml, or record longer");
        if (scanned == Scanned.Detuning) return [first, last];
        var edges = new List<int> { first };
        for (int e = first + 1; e <= last; e++)
            if (e == last || axis.EdgeSeconds(e) - axis.EdgeSeconds(edges[^1]) >= MapWidth * axis.EdgeSeconds(edges[^1])) edges.Add(e);
        return [.. edges];
    }
}
