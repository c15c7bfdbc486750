using System.Numerics.Tensors;
using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Counts that one molecule of known speed and Doppler shift leaves at each point of a laser scan, tabulated so that a hundred thousand
/// molecules cost little.</summary>
/// <remarks>Depletion at each detuning as in <see cref="ScanYield"/>, with the laser's jitter alone: the molecule brings its own transverse speed.
/// Counts stand in a table of detuning, in hundredths of the natural width, and speed, in steps of 8 %, linear between in detuning and 1/v; at
/// levels of the light 5 % apart. Relative error below 1e-3 within the line. Beyond 200 natural widths the counts of the edge stand.</remarks>
sealed class ScanCounts
{
    const double LogStep = 0.08, LightStep = 0.05, StepsPerWidth = 100, FarWidths = 200, Negligible = 1e-5;
    readonly double[] _lasers, _share;
    readonly int[] _level;
    readonly Setup _setup;
    readonly (double Low, double High) _speeds, _shifts;
    readonly double _slowest, _low, _step;
    readonly double[] _table;
    readonly int _rows, _columns;

    /// <param name="setup">The instrument.</param>
    /// <param name="axis">Laser readings and light of the points.</param>
    /// <param name="speeds">Lowest and highest speed that is asked for, m/s.</param>
    /// <param name="shifts">Lowest and highest reading of the laser that is asked for at which a molecule sees it on the line centroid, Hz.</param>
    public ScanCounts(Setup setup, SignalAxis axis, (double Low, double High) speeds, (double Low, double High) shifts)
    {
        setup = setup with { Probe = setup.Probe with { DetuningSpread = setup.Probe.LaserJitter } };
        (_setup, _speeds, _shifts) = (setup, speeds, shifts);
        _lasers = [.. axis.Points];
        (double dim, double bright) = (axis.Light.Min(), axis.Light.Max());
        int levels = 1 + (int)Math.Ceiling((bright - dim) / (LightStep * bright));
        double apart = (bright - dim) / Math.Max(1, levels - 1);
        _level = [.. axis.Light.Select(l => apart > 0 ? Math.Min((int)((l - dim) / apart), levels - 2) : 0)];
        _share = [.. axis.Light.Select((l, p) => apart > 0 ? (l - dim) / apart - _level[p] : 0)];
        double width = setup.Species.NaturalLinewidth.Value, far = FarWidths * width + setup.Species.Lines.Max(l => Math.Abs(l.OffsetHz));
        _step = width / StepsPerWidth;
        _low = Math.Clamp(_lasers.Min() - shifts.High, -far, far);
        _columns = (int)Math.Ceiling((Math.Clamp(_lasers.Max() - shifts.Low, -far, far) - _low) / _step) + 2;
        _slowest = speeds.Low;
        // without a limit counts go as 1/v exactly
        _rows = setup.Species.PhotonLimit is null ? 1 : (int)Math.Ceiling(Math.Log(speeds.High / speeds.Low) / LogStep) + 2;
        (int first, double[] kernel) = Kernel(setup);
        _table = new double[levels * _rows * _columns];
        for (int l = 0; l < levels; l++)
            Rows(setup with { Probe = setup.Probe.WithLight(dim + l * apart) }, first, kernel, _table.AsSpan(l * _rows * _columns, _rows * _columns));
    }

    /// <summary>Whether the same table is right in another setup, as it is where only geometry, times or the zero of the axis differ.</summary>
    public bool Serves(Setup setup, (double Low, double High) speeds, (double Low, double High) shifts) =>
        setup.Species == _setup.Species && Light(setup.Probe) == Light(_setup.Probe) && setup.CountsPerPhoton == _setup.CountsPerPhoton
        && speeds.Low >= _speeds.Low && speeds.High <= _speeds.High && shifts.Low >= _shifts.Low && shifts.High <= _shifts.High;

    static Probe Light(Probe probe) => probe with { Angle = default, AxisZero = default, Detuning = default, DetuningSpread = probe.LaserJitter };

    /// <summary>Fills in the counts at each point.</summary>
    /// <param name="speed">m/s.</param>
    /// <param name="shift">Reading of the laser at which the molecule sees it on the line centroid, Hz.</param>
    /// <param name="counts">[points].</param>
    public void Fill(double speed, double shift, Span<double> counts)
    {
        double at = _rows == 1 ? 0 : Math.Clamp(Math.Log(speed / _slowest) / LogStep, 0, _rows - 1.001);
        int row = (int)at, down = row + 1 < _rows ? _columns : 0;
        double ratio = _slowest * Math.Exp(row * LogStep) / speed, last = _columns - 1.001, perStep = 1 / _step;
        (double slow, double fast) = down == 0 ? (ratio, 0) : (1 - (1 - ratio) / Whole, (1 - ratio) / Whole);
        ReadOnlySpan<double> table = _table;
        for (int p = 0; p < counts.Length; p++)
        {
            double place = Math.Clamp((_lasers[p] - shift - _low) * perStep, 0, last), share = _share[p];
            int k = (int)place, at0 = (_level[p] * _rows + row) * _columns + k;
            double rest = place - k, dim = slow * Between(table, at0, rest) + fast * Between(table, at0 + down, rest);
            if (share == 0) { counts[p] = dim; continue; }
            int at1 = at0 + _rows * _columns;
            counts[p] = dim + share * (slow * Between(table, at1, rest) + fast * Between(table, at1 + down, rest) - dim);
        }
    }

    /// <summary>Difference of 1/v over a step, in units of 1/v.</summary>
    static readonly double Whole = 1 - Math.Exp(-LogStep);

    static double Between(ReadOnlySpan<double> table, int k, double rest) => table[k] + rest * (table[k + 1] - table[k]);

    /// <summary>Lines and jitter as weights on the steps of detuning; the first step, and weights from there.</summary>
    (int First, double[] Weights) Kernel(Setup setup)
    {
        double all = setup.Species.Lines.Sum(l => l.Weight);
        (double Place, double Weight)[] nodes = [.. setup.Species.Lines.SelectMany(line => new DetectionYield(setup).Spread.Select(s =>
            ((s.Shift - line.OffsetHz) / _step, s.Weight * line.Weight / all)))];
        int first = (int)Math.Floor(nodes.Min(n => n.Place));
        var weights = new double[(int)Math.Floor(nodes.Max(n => n.Place)) - first + 2];
        foreach ((double place, double weight) in nodes)
        {
            int k = (int)Math.Floor(place);
            weights[k - first] += weight * (1 - (place - k));
            weights[k - first + 1] += weight * (place - k);
        }
        return (first, weights);
    }

    void Rows(Setup lit, int first, double[] kernel, Span<double> rows)
    {
        var yield = new DetectionYield(lit);
        double[] exposure = [.. Enumerable.Range(0, _columns + kernel.Length).Select(k => yield.ExposureTimesSpeed(_low + (first + k) * _step))], single = new double[exposure.Length];
        for (int r = 0; r < _rows; r++)
        {
            double speed = _slowest * Math.Exp(r * LogStep);
            for (int k = 0; k < single.Length; k++) single[k] = lit.CountsPerPhoton * DetectionYield.Photons(exposure[k] / speed, lit.Species.PhotonLimit?.Value);
            Span<double> row = rows.Slice(r * _columns, _columns);
            for (int k = 0; k < kernel.Length; k++)
                if (kernel[k] > Negligible) TensorPrimitives.MultiplyAdd(single.AsSpan(k, _columns), kernel[k], row, row);
        }
    }
}

/// <summary>Tables of one scan: the first one made serves as long as it is right.</summary>
sealed class ScanTables(SignalAxis axis)
{
    const double Margin = 0.05;
    ScanCounts? _first;

    /// <param name="setup">The instrument.</param>
    /// <param name="speeds">Lowest and highest speed, m/s.</param>
    /// <param name="shifts">Lowest and highest reading on the line, Hz.</param>
    public ScanCounts For(Setup setup, (double Low, double High) speeds, (double Low, double High) shifts)
    {
        if (_first is { } known && known.Serves(setup, speeds, shifts)) return known;
        double room = Margin * Math.Max(Math.Abs(shifts.Low), Math.Abs(shifts.High));
        var made = new ScanCounts(setup, axis, (speeds.Low * (1 - Margin), speeds.High * (1 + Margin)), (shifts.Low - room, shifts.High + room));
        _first ??= made;
        return made;
    }
}
