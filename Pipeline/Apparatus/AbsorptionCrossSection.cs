namespace Pipeline.Apparatus;

/// <summary>Cross-section of one line for weak light.</summary>
public static class AbsorptionCrossSection
{
    /// <summary>Peak of a Gaussian over that of a Lorentzian of the same area and full width, 1.4757. Often left out: 32 % too low.</summary>
    static readonly double GaussianPeak = Math.Sqrt(Math.PI * Math.Log(2));

    /// <summary>Peak where the Doppler width is far larger than the natural one.</summary>
    /// <remarks>lambda^2/(2 pi) (g'/g) (gamma_p/Gamma_D) sqrt(pi ln 2), from the integral over angular frequency lambda^2/4 (g'/g) gamma_p, as in
    /// textbooks of laser physics.</remarks>
    /// <param name="wavelength">m, positive.</param>
    /// <param name="degeneracyRatio">Upper over lower number of substates, positive.</param>
    /// <param name="partialWidth">Natural full width of this line alone, of all that its upper level decays by, Hz; positive.</param>
    /// <param name="dopplerWidth">Full width at half maximum of the Doppler profile, Hz; positive.</param>
    /// <returns>m^2.</returns>
    public static double DopplerLimited(double wavelength, double degeneracyRatio, double partialWidth, double dopplerWidth) =>
        Guard.Positive(wavelength, nameof(wavelength)) * wavelength / (2 * Math.PI) * Guard.Positive(degeneracyRatio, nameof(degeneracyRatio))
        * Guard.Positive(partialWidth, nameof(partialWidth)) / Guard.Positive(dopplerWidth, nameof(dopplerWidth)) * GaussianPeak;
}
