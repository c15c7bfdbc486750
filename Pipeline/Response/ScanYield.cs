using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Counts that one molecule leaves at each point of a laser scan.</summary>
/// <remarks>Photons at each detuning are counted by the depletion of the molecule there, not by a scaled line: pumping makes lines wider and
/// flat. The rate along the transit is tabulated against detuning, in steps of a hundredth of the natural width,
/// for the dimmest and the brightest light of the scan.</remarks>
sealed class ScanYield
{
    /// <summary>Places in a cell at which counts are averaged.</summary>
    const int PerCell = 4;
    readonly Setup _setup;
    readonly IReadOnlyList<SpectralLine> _lines;
    readonly double[] _lasers;
    readonly double _low, _step;
    readonly double[] _light;
    readonly double _dim, _bright;
    readonly double[] _dimExposure, _brightExposure;
    readonly (double Shift, double Weight)[] _spread;

    /// <param name="setup">The instrument.</param>
    /// <param name="axis">Laser readings and light of the points.</param>
    /// <param name="fastest">Highest speed that is asked for, m/s.</param>
    public ScanYield(Setup setup, SignalAxis axis, double fastest)
    {
        (_setup, _lines) = (setup, setup.Lines);
        _lasers = [.. axis.Points.Select(p => p - setup.Probe.AxisZero.Value)];
        _light = [.. axis.Light];
        (_dim, _bright) = (_light.Min(), _light.Max());
        var yield = new DetectionYield(setup);
        _spread = yield.Spread;
        double doppler = Math.Abs(fastest * Math.Cos(setup.Probe.Angle.Value) / setup.Species.Wavelength.Value), lines = _lines.Max(l => Math.Abs(l.OffsetHz));
        double most = _lasers.Max(Math.Abs) + doppler + lines + _spread.Max(s => Math.Abs(s.Shift));
        _step = setup.Species.NaturalLinewidth.Value / 100;
        _low = -most - 2 * _step;
        int places = (int)Math.Ceiling(2 * -_low / _step) + 2;
        double[] Table(double light)
        {
            var lit = new DetectionYield(setup with { Probe = setup.Probe.WithLight(light) });
            return [.. Enumerable.Range(0, places).Select(k => lit.ExposureTimesSpeed(_low + k * _step))];
        }
        _dimExposure = Table(_dim);
        _brightExposure = _bright > _dim ? Table(_bright) : _dimExposure;
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
                        counts[p] += efficiency / PerCell * line.Weight / lines * weight * DetectionYield.Photons(ExposureAt(p, _lasers[p] + shift - line.OffsetHz - doppler) / speed, _setup.Species.PhotonLimit?.Value);
        }
        return counts;
    }

    /// <summary>Between dimmest and brightest light in proportion.</summary>
    double ExposureAt(int point, double delta)
    {
        double place = (delta - _low) / _step, share = _bright > _dim ? (_light[point] - _dim) / (_bright - _dim) : 0;
        int k = (int)place;
        double dim = _dimExposure[k] + (place - k) * (_dimExposure[k + 1] - _dimExposure[k]);
        return share == 0 ? dim : dim + share * (_brightExposure[k] + (place - k) * (_brightExposure[k + 1] - _brightExposure[k]) - dim);
    }
}
