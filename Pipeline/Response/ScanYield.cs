using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Counts that one molecule leaves at each point of a laser scan.</summary>
/// <remarks>Photons at each detuning are counted by the depletion of the molecule there, not by a scaled line: pumping makes lines wider and
/// flat. The rate along the transit is tabulated against detuning, in steps of a hundredth of the natural width.</remarks>
sealed class ScanYield
{
    /// <summary>Places in a cell at which counts are averaged.</summary>
    const int PerCell = 4;
    readonly Setup _setup;
    readonly IReadOnlyList<SpectralLine> _lines;
    readonly double[] _lasers;
    readonly LightTable _exposure;
    readonly (double Shift, double Weight)[] _spread;

    /// <param name="setup">The instrument.</param>
    /// <param name="axis">Laser readings and light of the points.</param>
    /// <param name="fastest">Highest speed that is asked for, m/s.</param>
    public ScanYield(Setup setup, SignalAxis axis, double fastest)
    {
        (_setup, _lines) = (setup, setup.Lines);
        _lasers = [.. axis.Points.Zip(axis.Order, setup.Probe.Steady).Select(p => p - setup.Probe.AxisZero.Value)];
        _spread = new DetectionYield(setup).Spread;
        double doppler = Math.Abs(fastest * Math.Cos(setup.Probe.Angle.Value) / setup.Species.Wavelength.Value), lines = _lines.Max(l => Math.Abs(l.OffsetHz));
        double most = _lasers.Max(Math.Abs) + doppler + lines + _spread.Max(s => Math.Abs(s.Shift));
        _exposure = new LightTable(setup, axis.Light, most, setup.Species.NaturalLinewidth.Value / 100, exposure => exposure);
    }

    /// <summary>[points] counts of a molecule that is evenly in [from, to) m/s.</summary>
    public double[] Counts(double from, double to)
    {
        var counts = new double[_lasers.Length];
        double efficiency = _setup.CountsPerPhoton, lines = _lines.Sum(l => l.Weight);
        for (int k = 0; k < PerCell; k++)
        {
            double speed = from + (k + 0.5) / PerCell * (to - from), doppler = speed * Math.Cos(_setup.Probe.Angle.Value) / _setup.Species.Wavelength.Value;
            for (int p = 0; p < counts.Length; p++)
                foreach (SpectralLine line in _lines)
                    foreach ((double shift, double weight) in _spread)
                        counts[p] += efficiency / PerCell * line.Weight / lines * weight * DetectionYield.Photons(_exposure.At(p, _lasers[p] + shift - line.OffsetHz - doppler) / speed, _setup.Species.PhotonLimit?.Value);
        }
        return counts;
    }
}
