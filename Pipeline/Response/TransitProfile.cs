using MathNet.Numerics.Integration;
using Pipeline.Apparatus;

namespace Pipeline.Response;

/// <summary>Where along the beam a molecule's photons come from: a few places with weights that sum to one.</summary>
/// <remarks>Photons follow the light, and come earlier where the molecule goes dark on its way: the density at z is proportional to
/// R(z) exp(-integral of R up to z / (v n_max)).</remarks>
public sealed class TransitProfile
{
    const int Nodes = 4;
    static readonly GaussLegendreRule Rule = new(-1, 1, Nodes);
    readonly double[] _places = new double[Nodes];
    readonly double[] _light = new double[Nodes];
    readonly double[] _lightBefore = new double[Nodes];

    public TransitProfile(Probe probe)
    {
        double half = probe.Shape == ProbeShape.TopHat ? 0.5 * probe.Width.Value : 1.5 * probe.Width.Value;
        for (int k = 0; k < Nodes; k++)
        {
            double z = half * Rule.GetAbscissa(k), u = z / probe.Width.Value;
            bool flat = probe.Shape == ProbeShape.TopHat;
            _places[k] = z;
            _light[k] = Rule.GetWeight(k) * (flat ? 1 : Math.Exp(-2 * u * u));
            _lightBefore[k] = flat ? 0.5 + u : 0.5 * MathNet.Numerics.SpecialFunctions.Erfc(-Math.Sqrt(2) * u);
        }
    }

    /// <summary>[nodes] distances from the middle of the probe, m, negative upstream.</summary>
    public ReadOnlySpan<double> Places => _places;

    /// <summary>Fills the weights for a molecule that is pumped this far.</summary>
    /// <param name="pumping">Exposure over photon limit, &gt;= 0.</param>
    /// <param name="weights">[nodes] to be filled; sum to 1.</param>
    public void Weights(double pumping, Span<double> weights)
    {
        double total = 0;
        for (int k = 0; k < Nodes; k++) total += weights[k] = _light[k] * Math.Exp(-pumping * (_lightBefore[k] - _lightBefore[0]));
        for (int k = 0; k < Nodes; k++) weights[k] /= total;
    }

    /// <summary>Number of places.</summary>
    public static int Count => Nodes;
}
