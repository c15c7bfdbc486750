namespace Pipeline.Quantities;

/// <summary>Constants of nature, CODATA 2022 recommended values (SI).</summary>
/// <remarks>Source: NIST, CODATA Internationally recommended 2022 values of the fundamental physical constants.</remarks>
public static class Codata
{
    /// <summary>Planck constant, J s; exact.</summary>
    public const double PlanckConstant = 6.62607015e-34;
    /// <summary>Boltzmann constant, J/K; exact.</summary>
    public const double BoltzmannConstant = 1.380649e-23;
    /// <summary>Speed of light in vacuum, m/s; exact.</summary>
    public const double SpeedOfLight = 299792458.0;
    /// <summary>Elementary charge, C; exact.</summary>
    public const double ElementaryCharge = 1.602176634e-19;
    /// <summary>Bohr magneton, J/T; standard uncertainty 2.9e-33.</summary>
    public const double BohrMagneton = 9.2740100657e-24;
    /// <summary>Atomic mass constant, kg; standard uncertainty 5.2e-37.</summary>
    public const double AtomicMassConstant = 1.66053906892e-27;
}
