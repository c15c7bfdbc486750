using System.Runtime.InteropServices;

namespace Pipeline.Reduction;

/// <summary>What is summed beside the samples of a shot.</summary>
/// <param name="Probe">Monitor less its zero, V.</param>
/// <param name="Ablation">Monitor less its zero, V.</param>
/// <param name="Detuning">Laser reading, Hz.</param>
/// <param name="Place">Place of the shot in the run.</param>
readonly record struct ShotReadings(double Probe, double Ablation, double Detuning, int Place);

/// <summary>Running sums of one condition and kind. Codes are added as integers, so the order of shots cannot change the result.</summary>
sealed class GroupSums(string condition, ShotKind kind, int point, RecordShape shape, SignalAxis axis, int shotsPerBlock)
{
    readonly List<double[]> _sums = [];
    readonly List<double> _shots = [], _probe = [], _ablation = [];
    readonly long[] _codeSum = new long[shape.Samples];
    readonly double[] _valueSum = new double[shape.Samples];
    int _kept;
    double _detuning, _place;

    public string Condition => condition;
    public ShotKind Kind => kind;
    /// <summary>Place of the earliest kept shot.</summary>
    public int First { get; private set; } = int.MaxValue;
    /// <summary>Place of the latest kept shot.</summary>
    public int Last { get; private set; } = int.MinValue;

    public void Add(ReadOnlySpan<int> codes, ShotReadings readings)
    {
        double[] bins = Begin(readings);
        for (int b = 0; b < bins.Length; b++)
        {
            long sum = 0;
            for (int i = axis.Edges[b]; i < axis.Edges[b + 1]; i++)
            {
                sum += codes[i];
                _codeSum[i] += codes[i];
            }
            bins[b] += sum;
        }
    }

    /// <summary>Analog: variance of the summed baselines, V^2.</summary>
    public double BaselineVariance { get; set; }

    public void Add(ReadOnlySpan<double> values, ShotReadings readings)
    {
        double[] bins = Begin(readings);
        for (int b = 0; b < bins.Length; b++)
            for (int i = axis.Edges[b]; i < axis.Edges[b + 1]; i++)
            {
                bins[b] += values[i];
                _valueSum[i] += values[i];
            }
    }

    double[] Begin(ShotReadings readings)
    {
        _detuning += readings.Detuning;
        _place += readings.Place;
        (First, Last) = (Math.Min(First, readings.Place), Math.Max(Last, readings.Place));
        if (_kept++ % shotsPerBlock == 0)
        {
            _sums.Add(new double[axis.Bins]);
            _shots.Add(0);
            _probe.Add(0);
            _ablation.Add(0);
        }
        CollectionsMarshal.AsSpan(_shots)[^1] += 1;
        CollectionsMarshal.AsSpan(_probe)[^1] += readings.Probe;
        CollectionsMarshal.AsSpan(_ablation)[^1] += readings.Ablation;
        return _sums[^1];
    }

    /// <summary>The sums in physical units: code * scale + offset, sample by sample.</summary>
    public ShotGroup ToGroup() => new()
    {
        Condition = condition,
        Kind = kind,
        Point = point,
        Detuning = _kept > 0 ? _detuning / _kept : double.NaN,
        BlockSums = [.. _sums.Select(PhysicalBlock)],
        BlockShots = [.. _shots],
        BaselineVariance = BaselineVariance,
        BlockProbeMonitor = [.. _probe],
        BlockAblationMonitor = [.. _ablation],
        FullSum = [.. _codeSum.Select((codes, i) => (codes + _valueSum[i]) * shape.Scale + shape.Offset * _kept)],
    };

    /// <summary>The same with its mean place between the first and the last kept shot of the run.</summary>
    public ShotGroup ToGroup(int first, int last) => ToGroup() with { Order = last > first && _kept > 0 ? (_place / _kept - first) / (last - first) - 0.5 : 0 };

    double[] PhysicalBlock(double[] sums, int block)
    {
        var physical = new double[axis.Bins];
        for (int k = 0; k < axis.Bins; k++)
            physical[k] = sums[k] * shape.Scale + shape.Offset * _shots[block] * (axis.Edges[k + 1] - axis.Edges[k]);
        return physical;
    }
}
