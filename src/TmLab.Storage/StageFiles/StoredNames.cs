using System.Text.Json;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Enumerations stand in files as their names in lower case (<c>trackers-interpolated</c>), so that a file can be read without this program.</summary>
internal static class StoredNames
{
    /// <summary>The name of a value.</summary>
    public static string Of<T>(T value)
        where T : struct, Enum => JsonNamingPolicy.KebabCaseLower.ConvertName(value.ToString());

    /// <summary>The value of a name.</summary>
    /// <exception cref="Failures.BadInputException">There is no such value.</exception>
    public static T Parse<T>(StageFileReader file, string place, string name)
        where T : struct, Enum
    {
        foreach (T value in Enum.GetValues<T>())
        {
            if (Of(value) == name)
            {
                return value;
            }
        }

        throw DamagedFiles.Damaged(file.Path, place, $"is \"{name}\", which is not known");
    }
}
