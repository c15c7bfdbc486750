using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>How a linear molecule in thermal equilibrium is spread over its rotational levels.</summary>
/// <remarks>Share of N: (2N + 1) exp(-h B N(N + 1)/kT)/Z, rigid rotor without exchange symmetry, spin left out. In a beam the rotational
/// temperature is not the translational one, and magnets select substates besides.</remarks>
public static class RotationalLevels
{
    /// <summary>Share of the molecules in one level.</summary>
    /// <param name="level">N, &gt;= 0.</param>
    /// <param name="rotationalConstantHz">B/h, Hz, positive.</param>
    /// <param name="temperature">K, positive.</param>
    /// <returns>In [0, 1]; shares of all levels sum to 1.</returns>
    public static double Share(int level, double rotationalConstantHz, double temperature)
    {
        if (level < 0) throw new ArgumentOutOfRangeException(nameof(level), level, "must be >= 0");
        return Occupation(level, Steps(rotationalConstantHz, temperature)) / PartitionFunction(rotationalConstantHz, temperature);
    }

    /// <summary>Z, the sum over all levels; near kT/(hB) + 1/3 where many are filled.</summary>
    /// <inheritdoc cref="Share"/>
    /// <returns>At least 1; relative error below 1e-13.</returns>
    public static double PartitionFunction(double rotationalConstantHz, double temperature)
    {
        double steps = Steps(rotationalConstantHz, temperature), sum = 0;
        for (int n = 0; ; n++)
        {
            double term = Occupation(n, steps);
            sum += term;
            // past the largest term the rest is at most kT/(hB) exp(-N(N + 1) hB/kT), its integral
            if (term < 1e-14 * (2 * n + 1) * steps * sum) return sum;
        }
    }

    static double Occupation(int n, double steps) => (2 * n + 1) * Math.Exp(-n * (n + 1.0) * steps);

    /// <summary>hB/kT.</summary>
    static double Steps(double rotationalConstantHz, double temperature) =>
        Codata.PlanckConstant * Guard.Positive(rotationalConstantHz, nameof(rotationalConstantHz)) / (Codata.BoltzmannConstant * Guard.Positive(temperature, nameof(temperature)));
}
