using MathNet.Numerics.Integration;
using Pipeline.Apparatus;

namespace Pipeline.Response;

/// <summary>Counts that one molecule leaves in the detector, as a function of its speed.</summary>
/// <remarks>Photons: n_max (1 - exp(-x/n_max)) with x the integral of the scattering rate over the transit; small x reads density
/// (counts fall as 1/v), large x reads flux. Scattering rate for n_g ground and n_e excited levels:
/// 2 pi Gamma n_e/(n_g + n_e) s/(1 + s + 4 delta^2/Gamma^2), Gamma the full natural width in Hz.</remarks>
public sealed class DetectionYield
{
    const int SpreadNodes = 24;
    static readonly GaussLegendreRule Across = new(-1, 1, 32);
    readonly Setup _setup;
    readonly IReadOnlyList<SpectralLine> _lines;

    public DetectionYield(Setup setup)
    {
        (_setup, _lines) = (setup, setup.Lines);
        Spread = DetuningSpread(setup.Probe.DetuningSpread.Value);
    }

    /// <summary>Mean counts for each molecule of this speed, in whatever level it is.</summary>
    /// <param name="speed">m/s, positive.</param>
    public double CountsAt(double speed) => _setup.CountsPerPhoton * PhotonsAt(speed);

    /// <summary>Mean photons that a molecule of this speed scatters.</summary>
    public double PhotonsAt(double speed)
    {
        double sum = 0, total = 0;
        foreach (SpectralLine line in _lines)
        {
            total += line.Weight;
            foreach ((double shift, double weight) in Spread)
                sum += line.Weight * weight * Photons(Exposure(speed, shift - line.OffsetHz));
        }
        return sum / total;
    }

    /// <summary>How far pumping goes: the mean of x/n_max; 0 without a photon limit.</summary>
    public double PumpingAt(double speed) =>
        _setup.Species.PhotonLimit is { } limit ? Exposure(speed, -_lines[0].OffsetHz) / limit.Value : 0;

    /// <summary>Nodes and weights of what spreads the detuning, Hz.</summary>
    public (double Shift, double Weight)[] Spread { get; }

    double Photons(double x) => Photons(x, _setup.Species.PhotonLimit?.Value);

    /// <summary>Mean photons for an integral of the scattering rate.</summary>
    /// <param name="x">The integral.</param>
    /// <param name="limit">Photons before the molecule goes dark; null: no limit.</param>
    public static double Photons(double x, double? limit) => limit is { } most ? -most * double.ExpM1(-x / most) : x;

    /// <summary>Integral of the scattering rate over the transit.</summary>
    double Exposure(double speed, double shift)
    {
        double doppler = speed * Math.Cos(_setup.Probe.Angle.Value) / _setup.Species.Wavelength.Value;
        return ExposureTimesSpeed(_setup.Probe.Detuning.Value + shift - doppler) / speed;
    }

    /// <summary>Integral of the scattering rate along the beam, m/s, for a molecule that sees this detuning, Hz.</summary>
    public double ExposureTimesSpeed(double delta)
    {
        Probe probe = _setup.Probe;
        if (probe.Shape == ProbeShape.TopHat) return Rate(1, delta) * probe.Width.Value;
        double sum = 0, reach = 2.5 * probe.Width.Value;
        for (int k = 0; k < Across.Order; k++)
        {
            double z = reach * Across.GetAbscissa(k), w = probe.Width.Value;
            sum += reach * Across.GetWeight(k) * Rate(Math.Exp(-2 * z * z / (w * w)), delta);
        }
        return sum;
    }

    /// <summary>Scattering rate, 1/s, where the intensity is this share of the peak.</summary>
    double Rate(double share, double delta)
    {
        double width = _setup.Species.NaturalLinewidth.Value, square = 4 * delta * delta / (width * width);
        if (_setup.Probe.ScatteringRate is { } peak) return peak.Value * share / (1 + square);
        double s = (_setup.Probe.Saturation ?? throw new InvalidOperationException("a probe has a saturation or a scattering rate")).Value * share;
        double excited = _setup.Species.ExcitedLevels, ground = _setup.Species.GroundLevels;
        return 2 * Math.PI * width * excited / (ground + excited) * s / (1 + s + square);
    }

    /// <summary>Nodes and weights of a normal average, by the midpoint rule over six deviations: spectrally exact for smooth lines.</summary>
    static (double, double)[] DetuningSpread(double sigma)
    {
        if (sigma == 0) return [(0, 1)];
        var nodes = new (double Shift, double Weight)[SpreadNodes];
        for (int k = 0; k < SpreadNodes; k++)
        {
            double u = (k + 0.5) / SpreadNodes * 12 - 6;
            nodes[k] = (u * sigma, Math.Exp(-0.5 * u * u));
        }
        double total = nodes.Sum(n => n.Weight);
        return [.. nodes.Select(n => (n.Shift, n.Weight / total))];
    }
}
