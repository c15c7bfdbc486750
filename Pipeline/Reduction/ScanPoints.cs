namespace Pipeline.Reduction;

/// <summary>Which point of a scan a shot belongs to.</summary>
sealed class ScanPoints
{
    readonly bool _scan;
    readonly double[]? _starts;
    readonly Dictionary<int, double> _median;

    /// <exception cref="DataFaultException">A scan whose shots have neither point nor laser reading.</exception>
    public ScanPoints(ReductionSettings settings, IReadOnlyList<ShotInfo> shots)
    {
        _scan = settings.ByPoint;
        if (_scan && shots.Any(s => !double.IsFinite(s.DetuningReadback)))
            throw new DataFaultException("scan", "shots without laser reading", "detuning for every shot", "name detuning under [shots] in the layout");
        if (_scan && shots.Any(s => s.Point is null))
            _starts = Starts(shots, settings.ScanStepHz ?? throw new DataFaultException("scan", "shots without a point", "the number of the scan's point for every shot", "name point under [shots] in the layout, or set scan_step under [analysis] in night.toml"));
        _median = shots.Where(s => double.IsFinite(s.DetuningReadback)).GroupBy(Of).ToDictionary(g => g.Key, g => g.Select(s => s.DetuningReadback).Order().ElementAt(g.Count() / 2));
    }

    /// <summary>Number of the point; -1 where nothing is scanned.</summary>
    public int Of(ShotInfo shot)
    {
        if (!_scan) return -1;
        if (_starts is null) return shot.Point!.Value;
        int at = Array.BinarySearch(_starts, shot.DetuningReadback);
        return at >= 0 ? at : ~at - 1;
    }

    /// <summary>Median laser reading of the shot's point, Hz; NaN where there is none.</summary>
    public double Median(ShotInfo shot) => _median.GetValueOrDefault(Of(shot), double.NaN);

    /// <summary>Where points begin: a reading further than the step from the first of its point begins another.</summary>
    static double[] Starts(IReadOnlyList<ShotInfo> shots, double step)
    {
        var starts = new List<double>();
        foreach (double reading in shots.Select(s => s.DetuningReadback).Order())
            if (starts.Count == 0 || reading - starts[^1] > step) starts.Add(reading);
        return [.. starts];
    }
}
