namespace Pipeline.Apparatus;

/// <summary>Share of isotropic light that a lens collects from a point on its axis.</summary>
/// <remarks>(1 - cos(theta))/2, theta the half angle. The usual NA^2/4 is 7 % too low at NA 0.5 and 14 % at 0.7; away from the axis the share is
/// smaller, and has to be traced or measured.</remarks>
public static class SolidAngle
{
    /// <param name="aperture">NA in vacuum, sin(theta), in (0, 1].</param>
    public static double FromNumericalAperture(double aperture)
    {
        if (!(aperture is > 0 and <= 1)) throw new ArgumentOutOfRangeException(nameof(aperture), aperture, "must lie in (0, 1]");
        // 1 - cos without its cancellation
        return 0.5 * aperture * aperture / (1 + Math.Sqrt(1 - aperture * aperture));
    }

    /// <param name="diameter">Clear diameter of the lens, m, positive.</param>
    /// <param name="distance">From the molecules to the plane of that diameter, m, positive.</param>
    public static double FromLens(double diameter, double distance)
    {
        double radius = 0.5 * Guard.Positive(diameter, nameof(diameter));
        return FromNumericalAperture(radius / double.Hypot(radius, Guard.Positive(distance, nameof(distance))));
    }
}
