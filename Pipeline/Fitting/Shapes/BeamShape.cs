using MathNet.Numerics.Integration;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>v^n exp(-((v - u)/alpha)^2) in the cells of a grid, normalised to one over the grid.</summary>
sealed class BeamShape
{
    const int Nodes = 3;
    readonly double[] _speed, _weight;
    readonly VelocityGrid _grid;

    /// <param name="grid">Cells.</param>
    /// <param name="power">n; 3 is the flux of a drifting gas, some authors write 2.</param>
    public BeamShape(VelocityGrid grid, double power)
    {
        (_grid, Power) = (grid, power);
        var rule = new GaussLegendreRule(-0.5, 0.5, Nodes);
        _speed = [.. Enumerable.Range(0, Nodes * grid.Cells).Select(k => grid.Centre(k / Nodes) + grid.Step * rule.GetAbscissa(k % Nodes))];
        _weight = [.. _speed.Select((v, k) => rule.GetWeight(k % Nodes) * Math.Pow(v, power))];
    }

    public double Power { get; }

    /// <summary>Speed of the largest density.</summary>
    /// <remarks>Zero of the derivative: v^2 - u v - n alpha^2/2 = 0.</remarks>
    public double Mode(double u, double alpha) => 0.5 * (u + Math.Sqrt(u * u + 2 * Power * alpha * alpha));

    /// <summary>Logarithm of the density, up to a constant.</summary>
    public double LogAt(double speed, double u, double alpha) => Power * Math.Log(speed) - (speed - u) / alpha * ((speed - u) / alpha);

    /// <param name="u">Drift, m/s.</param>
    /// <param name="alpha">Width, m/s.</param>
    /// <param name="number">All is multiplied by this.</param>
    /// <param name="share">[cells] for one molecule, not multiplied: the derivative with respect to the number.</param>
    /// <param name="byU">[cells] derivative of the molecules.</param>
    /// <param name="byAlpha">[cells] derivative of the molecules.</param>
    public void Fill(double u, double alpha, double number, Span<double> share, Span<double> byU, Span<double> byAlpha)
    {
        (double total, double totalU, double totalAlpha) = (0, 0, 0);
        // the exponent is taken relative to its largest value on the grid, so that a beam far outside does not underflow
        double nearest = Math.Clamp(u, _grid.From, _grid.To), shift = (nearest - u) / alpha * ((nearest - u) / alpha);
        for (int c = 0; c < share.Length; c++)
        {
            (double sum, double sumU, double sumAlpha) = (0, 0, 0);
            for (int k = Nodes * c; k < Nodes * (c + 1); k++)
            {
                double z = (_speed[k] - u) / alpha, f = _weight[k] * Math.Exp(shift - z * z), slope = f * 2 * z / alpha;
                (sum, sumU, sumAlpha) = (sum + f, sumU + slope, sumAlpha + slope * z);
            }
            (share[c], byU[c], byAlpha[c]) = (sum, sumU, sumAlpha);
            (total, totalU, totalAlpha) = (total + sum, totalU + sumU, totalAlpha + sumAlpha);
        }
        for (int c = 0; c < share.Length; c++)
        {
            share[c] /= total;
            byU[c] = number * (byU[c] - share[c] * totalU) / total;
            byAlpha[c] = number * (byAlpha[c] - share[c] * totalAlpha) / total;
        }
    }
}
