namespace Pipeline.Apparatus;

/// <summary>Constants of a doublet-Sigma molecule with one nucleus of spin 1/2, Hz.</summary>
/// <remarks>H/h = B N^2 + gamma N.S + b I.S + c (I.n)(S.n) + C_I N.I, n the axis of the molecule; Frosch and Foley, Phys. Rev. 88, 1337
/// (1952).</remarks>
public sealed record HyperfineConstants
{
    /// <summary>B, positive.</summary>
    public required double RotationalConstant { get; init => field = Guard.Positive(value); }
    /// <summary>gamma.</summary>
    public required double SpinRotation { get; init => field = Guard.Finite(value); }
    /// <summary>b of Frosch and Foley, which is not the contact constant b_F = b + c/3: see <see cref="FermiBOf"/>.</summary>
    public required double FermiB { get; init => field = Guard.Finite(value); }
    /// <summary>c.</summary>
    public required double DipolarC { get; init => field = Guard.Finite(value); }
    /// <summary>C_I.</summary>
    public double NuclearSpinRotation { get; init => field = Guard.Finite(value); }

    /// <summary>b from the contact constant: taking one for the other moves lines of CaF by 13 MHz.</summary>
    public static double FermiBOf(double contact, double dipolarC) => contact - dipolarC / 3;
}
