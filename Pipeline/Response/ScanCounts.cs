using System.Numerics.Tensors;
using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Counts that one molecule of known speed and Doppler shift leaves at each point of a laser scan, tabulated so that a hundred thousand
/// molecules cost little.</summary>
/// <remarks>Depletion at each detuning as in <see cref="ScanYield"/>, with the laser's jitter alone: the molecule brings its own transverse speed.
/// Counts times speed stand in a table of detuning, in hundredths of the natural width, and log speed, in steps of a tenth, linear between; at the
/// dimmest and the brightest light of the scan. Relative error below 1e-3 within the line. Beyond 200 natural widths the counts of the edge stand.</remarks>
sealed class ScanCounts
{
    const double LogStep = 0.1, StepsPerWidth = 100, FarWidths = 200, Negligible = 1e-9;
    readonly double[] _lasers, _share;
    readonly double _slowest, _low, _step;
    readonly double[][] _dim, _bright;

    /// <param name="setup">The instrument.</param>
    /// <param name="axis">Laser readings and light of the points.</param>
    /// <param name="speeds">Lowest and highest speed that is asked for, m/s.</param>
    /// <param name="shifts">Lowest and highest Doppler shift that is asked for, Hz.</param>
    public ScanCounts(Setup setup, SignalAxis axis, (double Low, double High) speeds, (double Low, double High) shifts)
    {
        setup = setup with { Probe = setup.Probe with { DetuningSpread = setup.Probe.LaserJitter } };
        _lasers = [.. axis.Points.Select(p => p - setup.Probe.AxisZero.Value)];
        (double dim, double bright) = (axis.Light.Min(), axis.Light.Max());
        _share = [.. axis.Light.Select(l => bright > dim ? (l - dim) / (bright - dim) : 0)];
        double width = setup.Species.NaturalLinewidth.Value, far = FarWidths * width + setup.Species.Lines.Max(l => Math.Abs(l.OffsetHz));
        _step = width / StepsPerWidth;
        _low = Math.Clamp(_lasers.Min() - shifts.High, -far, far);
        int columns = (int)Math.Ceiling((Math.Clamp(_lasers.Max() - shifts.Low, -far, far) - _low) / _step) + 2;
        _slowest = speeds.Low;
        // without a limit counts go as 1/v exactly
        int rows = setup.Species.PhotonLimit is null ? 1 : (int)Math.Ceiling(Math.Log(speeds.High / speeds.Low) / LogStep) + 2;
        (int first, double[] kernel) = Kernel(setup);
        double[][] Table(double light) => Rows(setup with { Probe = setup.Probe.WithLight(light) }, rows, columns, first, kernel);
        _dim = Table(dim);
        _bright = bright > dim ? Table(bright) : _dim;
    }

    /// <summary>Fills in the counts at each point.</summary>
    /// <param name="speed">m/s.</param>
    /// <param name="shift">Doppler shift: what the laser must read more, Hz.</param>
    /// <param name="counts">[points].</param>
    public void Fill(double speed, double shift, Span<double> counts)
    {
        double at = _dim.Length == 1 ? 0 : Math.Clamp(Math.Log(speed / _slowest) / LogStep, 0, _dim.Length - 1.001);
        int row = (int)at, next = Math.Min(row + 1, _dim.Length - 1);
        double fast = (at - row) / speed, slow = (1 - (at - row)) / speed, last = _dim[0].Length - 1.001;
        for (int p = 0; p < counts.Length; p++)
        {
            double place = Math.Clamp((_lasers[p] - shift - _low) / _step, 0, last);
            int k = (int)place;
            double dim = slow * Between(_dim[row], k, place - k) + fast * Between(_dim[next], k, place - k);
            counts[p] = _share[p] == 0 ? dim : dim + _share[p] * (slow * Between(_bright[row], k, place - k) + fast * Between(_bright[next], k, place - k) - dim);
        }
    }

    static double Between(double[] row, int k, double rest) => row[k] + rest * (row[k + 1] - row[k]);

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

    double[][] Rows(Setup lit, int rows, int columns, int first, double[] kernel)
    {
        var yield = new DetectionYield(lit);
        double[] exposure = [.. Enumerable.Range(0, columns + kernel.Length).Select(k => yield.ExposureTimesSpeed(_low + (first + k) * _step))], single = new double[exposure.Length];
        var table = new double[rows][];
        for (int r = 0; r < rows; r++)
        {
            double speed = _slowest * Math.Exp(r * LogStep), scale = lit.CountsPerPhoton * speed;
            for (int k = 0; k < single.Length; k++) single[k] = scale * DetectionYield.Photons(exposure[k] / speed, lit.Species.PhotonLimit?.Value);
            double[] row = table[r] = new double[columns];
            for (int k = 0; k < kernel.Length; k++)
                if (kernel[k] > Negligible) TensorPrimitives.MultiplyAdd(single.AsSpan(k, columns), kernel[k], row, row);
        }
        return table;
    }
}
