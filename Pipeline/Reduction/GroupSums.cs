using System.Runtime.InteropServices;

namespace Pipeline.Reduction;

/// <summary>Running sums of one condition and kind. Codes are added as integers, so the order of shots cannot change the result.</summary>
sealed class GroupSums(string condition, ShotKind kind, int point, RecordShape shape, SignalAxis axis, int shotsPerBlock)
{
    readonly List<double[]> _sums = [];
    readonly List<double> _shots = [], _probe = [], _ablation = [];
    readonly long[] _codeSum = new long[shape.Samples];
    readonly double[] _valueSum = new double[shape.Samples];
    int _kept;
    double _detuning;

    public string Condition => condition;
    public ShotKind Kind => kind;

    public void Add(ReadOnlySpan<int> codes, double probe, double ablation, double detuning)
    {
        double[] bins = Begin(probe, ablation, detuning);
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

    public void Add(ReadOnlySpan<double> values, double probe, double ablation, double detuning)
    {
        double[] bins = Begin(probe, ablation, detuning);
        for (int b = 0; b < bins.Length; b++)
            for (int i = axis.Edges[b]; i < axis.Edges[b + 1]; i++)
            {
                bins[b] += values[i];
                _valueSum[i] += values[i];
            }
    }

    double[] Begin(double probe, double ablation, double detuning)
    {
        _detuning += detuning;
        if (_kept++ % shotsPerBlock == 0)
        {
            _sums.Add(new double[axis.Bins]);
            _shots.Add(0);
            _probe.Add(0);
            _ablation.Add(0);
        }
        CollectionsMarshal.AsSpan(_shots)[^1] += 1;
        CollectionsMarshal.AsSpan(_probe)[^1] += probe;
        CollectionsMarshal.AsSpan(_ablation)[^1] += ablation;
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

    double[] PhysicalBlock(double[] sums, int block)
    {
        var physical = new double[axis.Bins];
        for (int k = 0; k < axis.Bins; k++)
            physical[k] = sums[k] * shape.Scale + shape.Offset * _shots[block] * (axis.Edges[k + 1] - axis.Edges[k]);
        return physical;
    }
}
