using Pipeline.Apparatus;

namespace Pipeline.Response;

/// <summary>What the light of each point of a scan does to a molecule, tabulated against detuning for the dimmest and the brightest light of
/// the scan; points between them lie in proportion.</summary>
sealed class LightTable
{
    readonly double _low, _step, _dim, _bright;
    readonly IReadOnlyList<double> _light;
    readonly double[] _dimTable, _brightTable;

    /// <param name="setup">The instrument.</param>
    /// <param name="light">[points] probe light relative to the mean of the scan.</param>
    /// <param name="most">Largest detuning that is asked for, of either sign, Hz.</param>
    /// <param name="step">Hz.</param>
    /// <param name="of">What is tabulated, a function of <see cref="DetectionYield.ExposureTimesSpeed"/>.</param>
    public LightTable(Setup setup, IReadOnlyList<double> light, double most, double step, Func<double, double> of)
    {
        (_light, _dim, _bright, _step, _low) = (light, light.Min(), light.Max(), step, -most - 2 * step);
        int places = (int)Math.Ceiling(2 * -_low / _step) + 2;
        double[] Table(double times)
        {
            var lit = new DetectionYield(setup with { Probe = setup.Probe.WithLight(times) });
            return [.. Enumerable.Range(0, places).Select(k => of(lit.ExposureTimesSpeed(_low + k * _step)))];
        }
        _dimTable = Table(_dim);
        _brightTable = _bright > _dim ? Table(_bright) : _dimTable;
    }

    /// <summary>At a point of the scan; beyond the table the value of its end.</summary>
    /// <param name="point">The point.</param>
    /// <param name="delta">Detuning that the molecule sees, Hz.</param>
    public double At(int point, double delta)
    {
        double place = Math.Clamp((delta - _low) / _step, 0, _dimTable.Length - 2), share = _bright > _dim ? (_light[point] - _dim) / (_bright - _dim) : 0;
        int k = (int)place;
        double dim = _dimTable[k] + (place - k) * (_dimTable[k + 1] - _dimTable[k]);
        return share == 0 ? dim : dim + share * (_brightTable[k] + (place - k) * (_brightTable[k + 1] - _brightTable[k]) - dim);
    }
}
