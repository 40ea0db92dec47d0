/* Reads an EDF+ file with Debian's EDF library (libedf-dev) and prints what it found:

     signals N, records N, duration D (in 100 ns)
     patient code|gender|birthdate|name
     date Y M D
     signal LABEL UNIT PHYSMIN PHYSMAX DIGMIN DIGMAX SAMPLES
     <one sample a line, as a digital number>
     annotation ONSET DURATION TEXT   (times in 100 ns)

   It exits with 1 and the library's number where the library refuses the file. */
#include <edflib.h>

int main(int argc, char **argv) {
  static struct edf_hdr_struct h;
  if (argc != 2) return 2;
  if (edfopen_file_readonly(argv[1], &h, EDFLIB_READ_ALL_ANNOTATIONS)) {
    printf("refused %d\n", h.filetype);
    return 1;
  }
  printf("type %d signals %d records %lld duration %lld\n", h.filetype, h.edfsignals, h.datarecords_in_file, h.file_duration);
  printf("patient %s|%s|%s|%s\n", h.patientcode, h.gender, h.birthdate, h.patient_name);
  printf("equipment %s\n", h.equipment);
  printf("date %d %d %d\n", h.startdate_year, h.startdate_month, h.startdate_day);
  for (int s = 0; s < h.edfsignals; s++) {
    struct edf_param_struct *p = &h.signalparam[s];
    printf("signal %s|%s|%g|%g|%d|%d|%lld\n", p->label, p->physdimension, p->phys_min, p->phys_max, p->dig_min, p->dig_max, p->smp_in_file);
    int *buf = malloc(sizeof(int) * p->smp_in_file);
    if (edfread_digital_samples(h.handle, s, p->smp_in_file, buf) != p->smp_in_file) return 3;
    for (long long k = 0; k < p->smp_in_file; k++) printf("%d\n", buf[k]);
    free(buf);
  }
  for (long long n = 0; n < h.annotations_in_file; n++) {
    struct edf_annotation_struct a;
    if (edf_get_annotation(h.handle, n, &a)) return 4;
    printf("annotation %lld %lld %s\n", a.onset, a.duration_l, a.annotation);
  }
  edfclose_file(h.handle);
  return 0;
}
