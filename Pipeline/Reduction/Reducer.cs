using System.Globalization;
using Pipeline.Apparatus;

namespace Pipeline.Reduction;

/// <summary>Shots to a <see cref="BinnedRun"/>: checks every shot on its housekeeping and sums the rest.</summary>
public static class Reducer
{
    /// <summary>Expected steady counts in an empty record above which an empty record means that there was no trigger.</summary>
    const double PlausibleCounts = 20;

    /// <param name="shape">The record.</param>
    /// <param name="allShots">Housekeeping of every shot of the file, for medians.</param>
    /// <param name="blocks">The shots; enumerated once.</param>
    /// <param name="detector">For the zeros of the monitors.</param>
    /// <param name="settings">Checks and bins.</param>
    public static BinnedRun Reduce(
        RecordShape shape, IReadOnlyList<ShotInfo> allShots, IEnumerable<ShotBlock> blocks, Detector detector, ReductionSettings settings)
    {
        SignalAxis axis = AxisDesign.For(shape, settings.RelativeBinWidth, settings.ShortestBinSeconds);
        var pass = new ReductionPass(shape, axis, detector, settings, allShots);
        foreach (ShotBlock block in blocks) pass.Add(block);
        return pass.Finish(PlausibleCounts);
    }
}

/// <summary>The state of one pass over the shots.</summary>
sealed class ReductionPass(RecordShape shape, SignalAxis axis, Detector detector, ReductionSettings settings, IReadOnlyList<ShotInfo> allShots)
{
    /// <summary>Blocks a group should have at least, while a block is more than one shot: with 12 blocks the pulls of the number were 1.15
    /// wide over 400 runs, as Student's t with 11 degrees of freedom is.</summary>
    const int FewestBlocks = 40;


    readonly IReadOnlyList<IShotCheck> _checks = ShotChecks.For(settings, shape, allShots);
    /// <summary>Analog samples are summed in volts, less their baseline; counts as recorded.</summary>
    readonly RecordShape _sumShape = shape.Kind == DetectorKind.Analog ? shape with { Scale = 1, Offset = 0 } : shape;
    readonly ShotPlaces _places = new(allShots);
    readonly ScanPoints _points = new(settings, allShots);
    readonly Dictionary<(string, ShotKind, int), int> _recorded = [];
    readonly Dictionary<(string, ShotKind, int), GroupSums> _groups = [];
    readonly SortedDictionary<string, List<long>> _cuts = new(StringComparer.Ordinal);
    readonly TransferLine? _transfer = shape.Kind == DetectorKind.Analog ? new TransferLine(detector, shape.TickSeconds) : null;
    readonly List<ShotInfo> _empty = [];
    /// <summary>Counting: empty records since the last one that was not.</summary>
    int _emptyAtEnd;
    double[] _previous = [];
    readonly List<string> _remarks = [];
    int _read;

    public void Add(ShotBlock block)
    {
        if (block.Samples != shape.Samples)
            throw new ArgumentOutOfRangeException(nameof(block), block.Samples, $"must have {shape.Samples} samples a shot");
        for (int k = 0; k < block.Shots.Count; k++)
        {
            _read++;
            if (shape.Kind == DetectorKind.Analog) AddAnalog(block, k);
            else if (block.Codes is { } codes) AddShot(block.Shots[k], codes.AsSpan(k * shape.Samples, shape.Samples));
            else AddShot(block.Shots[k], block.Values.AsSpan(k * shape.Samples, shape.Samples));
        }
    }

    void AddShot(ShotInfo info, ReadOnlySpan<int> codes)
    {
        int low = System.Numerics.Tensors.TensorPrimitives.Min(codes), high = System.Numerics.Tensors.TensorPrimitives.Max(codes);
        if (Kept(info, low, high)) Group(info).Add(codes, Readings(info));
    }

    void AddShot(ShotInfo info, ReadOnlySpan<double> values)
    {
        double low = System.Numerics.Tensors.TensorPrimitives.Min(values), high = System.Numerics.Tensors.TensorPrimitives.Max(values);
        if (Kept(info, low, high)) Group(info).Add(values, Readings(info));
    }

    /// <summary>Analog shots in volts, less their own baseline.</summary>
    void AddAnalog(ShotBlock block, int shot)
    {
        var range = new Range(shot * shape.Samples, (shot + 1) * shape.Samples);
        double[] recorded = block.Codes is { } codes ? Array.ConvertAll(codes[range], c => (double)c) : block.Values![range];
        ShotInfo info = block.Shots[shot];
        if (!Kept(info, recorded.Min(), recorded.Max())) return;
        for (int i = 0; i < recorded.Length; i++) recorded[i] = recorded[i] * shape.Scale + shape.Offset;
        // noise never comes twice: the digitiser handed out its old buffer
        bool same = _previous.AsSpan().SequenceEqual(recorded);
        _previous = [.. recorded];
        if (same)
        {
            Cut("repeated record", info.Number);
            return;
        }
        AnalogRecord record = AnalogRecord.Of(recorded, shape);
        if (settings.TriggerMarkWithinSeconds is { } within && !record.HasMark(within))
        {
            Cut("missing trigger", info.Number);
            return;
        }
        GroupSums group = Group(info);
        group.Add(record.Volts, Readings(info));
        group.BaselineVariance += record.BaselineVariance;
        _transfer?.Add(info, record.Volts);
    }

    bool Kept(ShotInfo info, double low, double high)
    {
        bool empty = shape.Kind == DetectorKind.Counting && low == 0 && high == 0;
        _emptyAtEnd = empty ? _emptyAtEnd + 1 : 0;
        if (empty && settings.CutFlatRecords && !info.Repeated)
        {
            _empty.Add(info);
            return false;
        }
        var view = new ShotView(info, low, high, _points.Median(info));
        foreach (IShotCheck check in _checks)
        {
            if (!check.Cuts(view)) continue;
            Cut(check.Reason, info.Number);
            return false;
        }
        return true;
    }

    void Cut(string reason, long number)
    {
        if (!_cuts.TryGetValue(reason, out List<long>? numbers)) _cuts[reason] = numbers = [];
        numbers.Add(number);
    }

    /// <summary>Only molecules see the laser's frequency: shots without them are summed over all points.</summary>
    (string, ShotKind, int) Key(ShotInfo info) => (info.Condition, info.Kind, info.Kind == ShotKind.Signal ? _points.Of(info) : -1);

    GroupSums Group(ShotInfo info)
    {
        if (!_groups.TryGetValue(Key(info), out GroupSums? sums))
            _groups[Key(info)] = sums = new GroupSums(info.Condition, info.Kind, Key(info).Item3, _sumShape, axis, ShotsPerBlock(info));
        return sums;
    }

    int ShotsPerBlock(ShotInfo info)
    {
        if (_recorded.Count == 0) foreach (ShotInfo shot in allShots) _recorded[Key(shot)] = _recorded.GetValueOrDefault(Key(shot)) + 1;
        return Math.Clamp(_recorded.GetValueOrDefault(Key(info)) / FewestBlocks, 1, settings.ShotsPerBlock);
    }

    ShotReadings Readings(ShotInfo info) =>
        new(info.ProbeMonitor - detector.ProbeMonitorZero.Value, info.AblationMonitor - detector.AblationMonitorZero.Value, info.DetuningReadback, _places.Of(info));

    public BinnedRun Finish(double plausibleCounts)
    {
        if (shape.Unfilled > 0) _remarks.Add(string.Create(CultureInfo.InvariantCulture, $"{shape.Unfilled} places at the end of the file were made beforehand and hold no shot"));
        JudgeEnd(plausibleCounts);
        JudgeEmptyRecords(plausibleCounts);
        if (_transfer?.Remark() is { } line) _remarks.Add(line);
        (int first, int last) = (_groups.Values.Select(g => g.First).DefaultIfEmpty().Min(), _groups.Values.Select(g => g.Last).DefaultIfEmpty().Max());
        return new BinnedRun
        {
            DetectorKind = shape.Kind,
            Axis = axis,
            Groups = [.. _groups.Values.Select(g => g.ToGroup(first, last))
                .OrderBy(g => g.Condition, StringComparer.Ordinal).ThenBy(g => g.Kind).ThenBy(g => g.Point)],
            ShotsRead = _read,
            Cuts = [.. _cuts.Select(c => new ShotCut(c.Key, c.Value))],
            Remarks = _remarks,
        };
    }

    /// <summary>Empty records at the end of the file are places that were never written, where together they should have held many steady
    /// counts: single ones may each be too short to tell.</summary>
    void JudgeEnd(double plausibleCounts)
    {
        ShotInfo[] end = [.. _empty.TakeLast(Math.Min(_emptyAtEnd, _empty.Count))];
        double expected = end.GroupBy(Key).Sum(g => g.Count() * Expected(g.First()));
        if (end.Length < 2 || expected < plausibleCounts) return;
        foreach (ShotInfo shot in end) Cut("never written", shot.Number);
        _empty.RemoveRange(_empty.Count - end.Length, end.Length);
    }

    double Expected(ShotInfo shot) => _groups.TryGetValue(Key(shot), out GroupSums? sums) ? SteadyCounts(sums.ToGroup()) : 0;

    /// <summary>A counting record without a single count is a missing trigger only where steady light and dark counts would have
    /// shown; else it is a legitimate zero, and cutting it would bias the mean.</summary>
    void JudgeEmptyRecords(double plausibleCounts)
    {
        foreach (var kind in _empty.GroupBy(Key))
        {
            double expected = Expected(kind.First());
            if (expected >= plausibleCounts) foreach (ShotInfo shot in kind) Cut("missing trigger", shot.Number);
            else KeepEmpty([.. kind], expected);
        }
    }

    void KeepEmpty(IReadOnlyList<ShotInfo> shots, double expected)
    {
        int[] nothing = new int[shape.Samples];
        foreach (ShotInfo shot in shots) Group(shot).Add(nothing, Readings(shot));
        _remarks.Add(string.Create(CultureInfo.InvariantCulture,
            $"{shots.Count} {(shots.Count == 1 ? "record" : "records")} of {shots[0].Condition} without a single count kept: with about {expected:F1} steady counts expected in one, none is no sign of a missing trigger"));
    }

    /// <summary>Counts a record would hold if all of it were like the time before the trigger.</summary>
    double SteadyCounts(ShotGroup group)
    {
        int trigger = Math.Clamp((int)(-shape.OriginSeconds / shape.TickSeconds), 0, shape.Samples);
        return trigger == 0 ? 0 : group.FullSum.Take(trigger).Sum() / trigger * shape.Samples / group.Shots;
    }
}
